"""A dialogue with the kernel in jupyter console, as a user types it on a terminal.

usage: console_check.py
Needs: jupyter_console and pexpect in this Python, JUPYTER_PATH with the kernel's entry.
"""
import os
import re
import sys

import pexpect

env = dict(os.environ, TERM="dumb", PROMPT_TOOLKIT_NO_CPR="1", COLUMNS="120", LINES="50")
con = pexpect.spawn(sys.executable, ["-m", "jupyter_console", "--kernel=ampturn", "--simple-prompt", "--no-confirm-exit"],
                    env=env, encoding="utf-8", timeout=60, dimensions=(50, 120))
log = open(sys.argv[1], "w") if len(sys.argv) > 1 else None
con.logfile_read = log


def dialogue(number, typed, *expected):
    con.expect(r"In \[%d\]: " % number)
    for line in typed.split("\n"):
        con.sendline(line)
    for text in expected:
        con.expect(re.escape(text))
    print(f"In [{number}]: {typed!r} -> {expected}", flush=True)


try:
    dialogue(1, "6*7", "42")
    dialogue(2, 'fer := NewMaterial("lot 12", Linear(2200)); R1 := Magnetic("R1"); R1.Ring("core", Leg(fer, 47*mm, Rect(5*mm, 8*mm)), Winding("N", 20*turn)); R1.Solve().Inductance("N")', "941.1 uH")
    dialogue(3, "Gap(0.6)", "wants metre")
    dialogue(4, 'fmt.Println("got", Ask("name? "))', "\r\nname? ")
    con.sendline("ferrite")
    con.expect("got ferrite")
    dialogue(5, "Pause(600*second)")
    con.expect_exact("Pause(600*second)", timeout=10)
    try:
        con.expect("nothing of this kind", timeout=1)  # the cell runs now
    except pexpect.TIMEOUT:
        pass
    con.sendintr()
    con.expect("interrupted in cell 5")
    dialogue(6, "R1", "R1")
    con.expect(r"In \[7\]: ")
    con.sendeof()
    con.expect(pexpect.EOF)
    print("jupyter console: dialogue, refusal, question, interrupt")
except (pexpect.TIMEOUT, pexpect.EOF) as e:
    sys.exit(f"jupyter console: {type(e).__name__}\nthe screen: {con.before!r}")
finally:
    con.close(force=True)
