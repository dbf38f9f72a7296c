"""Drives JupyterLab in a headless browser: opens notebooks with the ampturn kernel, runs all cells, looks for
pictures, completes a name, shows a hover, interrupts an endless loop, restarts, reruns with equal outputs.

usage: jupyterlab_check.py OUTDIR NOTEBOOK...
Needs: jupyterlab and selenium in this Python, chromium and chromedriver, JUPYTER_PATH with the kernel's entry.
Screenshots (light and dark theme) go to OUTDIR.
"""
import json
import os
import pathlib
import shutil
import socket
import subprocess
import sys
import tempfile
import time
import urllib.request

from selenium import webdriver
from selenium.webdriver.common.action_chains import ActionChains
from selenium.webdriver.common.keys import Keys
from selenium.webdriver.chrome.options import Options
from selenium.webdriver.chrome.service import Service

out = pathlib.Path(sys.argv[1])
books = [pathlib.Path(p).resolve() for p in sys.argv[2:]]
out.mkdir(parents=True, exist_ok=True)
work = pathlib.Path(tempfile.mkdtemp(prefix="ampturn-lab-"))


def free_port():
    with socket.socket() as s:
        s.bind(("127.0.0.1", 0))
        return s.getsockname()[1]


port = free_port()
env = dict(os.environ, HOME=str(work / "home"), JUPYTER_CONFIG_DIR=str(work / "conf"), JUPYTER_DATA_DIR=str(work / "data"),
           JUPYTER_RUNTIME_DIR=str(work / "run"), JUPYTERLAB_SETTINGS_DIR=str(work / "settings"), JUPYTERLAB_WORKSPACES_DIR=str(work / "ws"))
(work / "home").mkdir()
(work / "nb").mkdir()
quiet = work / "settings" / "@jupyterlab" / "apputils-extension"
quiet.mkdir(parents=True)
(quiet / "notification.jupyterlab-settings").write_text(json.dumps({"fetchNews": "false"}))
for b in books:  # with the data beside it
    shutil.copytree(b.parent, work / "nb", ignore=shutil.ignore_patterns("*.ipynb", ".ipynb_checkpoints"), dirs_exist_ok=True)
for b in books:
    shutil.copy(b, work / "nb" / b.name)
endless = {"cells": [
    {"cell_type": "code", "id": "a1", "metadata": {}, "execution_count": None, "outputs": [], "source": "before := 7"},
    {"cell_type": "code", "id": "a2", "metadata": {}, "execution_count": None, "outputs": [], "source": "for {\n\tbefore++\n}"},
    {"cell_type": "code", "id": "a3", "metadata": {}, "execution_count": None, "outputs": [], "source": "Magnet"}],
    "metadata": {"kernelspec": {"display_name": "ampturn", "language": "go", "name": "ampturn"}}, "nbformat": 4, "nbformat_minor": 5}
(work / "nb" / "endless.ipynb").write_text(json.dumps(endless))

server = subprocess.Popen([sys.executable, "-m", "jupyterlab", "--no-browser", "--allow-root", f"--port={port}", "--ServerApp.port_retries=0",
                           "--IdentityProvider.token=", "--ServerApp.password=", "--expose-app-in-browser", "--ServerApp.ip=127.0.0.1",
                           "--LabApp.news_url=", "--LabApp.check_for_updates_class=jupyterlab.NeverCheckForUpdate", f"--ServerApp.root_dir={work / 'nb'}"],
                          env=env, stdout=open(out / "server.log", "w"), stderr=subprocess.STDOUT)
driver = None


def until(what, probe, limit=60.0):
    end = time.time() + limit
    while time.time() < end:
        try:
            value = probe()
            if value:
                return value
        except Exception:  # the page may be between two states
            pass
        time.sleep(0.1)
    driver and driver.save_screenshot(str(out / "failed.png"))
    raise SystemExit(f"jupyterlab: {what}: not within {limit:.0f} s")


def js(code, *args):
    return driver.execute_script(code, *args)


PANEL = "const w = window.jupyterapp.shell.currentWidget; const nb = w.content; const k = w.sessionContext.session?.kernel;"


def command(name, args="{}"):
    return driver.execute_async_script(
        f"const done = arguments[0]; window.jupyterapp.commands.execute('{name}', {args}).then(() => done('ok'), e => done(String(e)));")


def outputs():
    return js(PANEL + "return nb.model.sharedModel.cells.filter(c => c.cell_type == 'code').map(c => c.toJSON().outputs.map(o => { const d = {...o}; delete d.execution_count; delete d.metadata; return JSON.stringify(d); }).join('\\n'));")


def open_book(name):
    driver.get(f"http://127.0.0.1:{port}/lab/tree/{name}?reset")
    until(f"{name} opens with an idle kernel", lambda: js(PANEL + "return w.context.isReady && k && k.status == 'idle' && k.name == 'ampturn';"))


def run_all(name):
    command("notebook:run-all-cells")
    until(f"{name} runs", lambda: js(PANEL + "const cs = nb.model.sharedModel.cells.filter(c => c.cell_type == 'code' && c.source.trim()); return k.status == 'idle' && cs.every(c => c.execution_count);"), 90)
    time.sleep(0.3)


try:
    until("the server answers", lambda: urllib.request.urlopen(f"http://127.0.0.1:{port}/api", timeout=1).status == 200)
    o = Options()
    for flag in ("--headless=new", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
                 "--disable-component-update", "--disable-sync", "--window-size=1400,1400", f"--user-data-dir={work / 'profile'}"):
        o.add_argument(flag)
    o.binary_location = os.environ.get("AMPTURN_CHROMIUM") or shutil.which("chromium")
    driver = webdriver.Chrome(service=Service(shutil.which("chromedriver")), options=o)
    driver.set_script_timeout(60)
    for b in books:
        open_book(b.name)
        run_all(b.name)
        first = outputs()
        errors = [t for t in first if '"output_type":"error"' in t]
        if errors:
            raise SystemExit(f"{b.name}: {errors[0][:500]}")
        expected = sum("image/svg+xml" in t for t in first)
        shown = js("return [...document.querySelectorAll('.jp-OutputArea-output svg, .jp-OutputArea-output img')].filter(e => e.getBoundingClientRect().width > 100).length;")
        if expected and not shown:
            raise SystemExit(f"{b.name}: {expected} cells with pictures, none is seen")
        driver.save_screenshot(str(out / f"{b.stem}-light.png"))
        # after a restart the front end knows the kernel's state only once a cell has run: wait for the connection alone
        done = driver.execute_async_script(PANEL + "const done = arguments[0]; k.restart().then(() => done('ok'), e => done(String(e)));")
        if done != "ok":
            raise SystemExit(f"{b.name}: restart: {done}")
        until("the kernel is connected again", lambda: js(PANEL + "return k.connectionStatus == 'connected';"))
        command("notebook:clear-all-cell-outputs")
        run_all(b.name)
        again = outputs()
        if again != first:
            bad = next(i for i, (x, y) in enumerate(zip(first, again)) if x != y)
            raise SystemExit(f"{b.name}: after a restart cell {bad + 1} shows something else:\n{first[bad][:400]}\n{again[bad][:400]}")
        print(f"{b.name}: {len(first)} cells, {expected} with pictures ({shown} seen), equal after a restart", flush=True)
    command("apputils:change-theme", "{theme: 'JupyterLab Dark'}")
    time.sleep(1)
    driver.save_screenshot(str(out / f"{books[-1].stem}-dark.png"))

    open_book("endless.ipynb")
    js(PANEL + "nb.activeCellIndex = 0;")
    command("notebook:run-cell")
    js(PANEL + "nb.activeCellIndex = 1;")
    js("window.jupyterapp.commands.execute('notebook:run-cell'); return 1;")
    until("the endless cell runs", lambda: js(PANEL + "return k.status == 'busy';"))
    time.sleep(0.5)
    # completion and hover answer while the cell runs
    done = driver.execute_async_script(PANEL + "const done = arguments[0]; k.requestComplete({code: 'Magnet', cursor_pos: 6}).then(r => done(r.content.matches), e => done(String(e)));")
    if "Magnetic" not in done:
        raise SystemExit(f"completion of 'Magnet' gives {done}")
    seen = driver.execute_async_script(PANEL + "const done = arguments[0]; k.requestInspect({code: 'Gap', cursor_pos: 2, detail_level: 0}).then(r => done(r.content.data['text/plain'] || ''), e => done(String(e)));")
    if "gap" not in seen.lower():
        raise SystemExit(f"the hover of Gap says {seen!r}")
    start = time.time()
    js(PANEL + "k.interrupt(); return 1;")
    until("the interrupt ends the cell and is told", lambda: "interrupted" in outputs()[1], 10)
    took = time.time() - start
    # a completer popup as a user sees it
    js(PANEL + "nb.activeCellIndex = 2; nb.mode = 'edit'; const e = nb.activeCell.editor; e.focus(); e.setCursorPosition({line: 0, column: 6}); return 1;")
    js("window.jupyterapp.commands.execute('completer:invoke-notebook'); return 1;")
    until("the completer pops up", lambda: "Magnetic" in js("const c = document.querySelector('.jp-Completer:not(.lm-mod-hidden)'); return c ? c.innerText : '';"), 20)
    driver.save_screenshot(str(out / "completer-dark.png"))
    # a hover as a user sees it: Shift-Tab on a name
    ActionChains(driver).send_keys(Keys.ESCAPE).perform()
    until("the completer is gone", lambda: js("return !document.querySelector('.jp-Completer:not(.lm-mod-hidden)');"), 10)
    js(PANEL + "nb.activeCell.model.sharedModel.setSource('Gap(0.6*mm)'); nb.mode = 'edit'; const e = nb.activeCell.editor; e.focus(); e.setCursorPosition({line: 0, column: 2}); return 1;")
    ActionChains(driver).key_down(Keys.SHIFT).send_keys(Keys.TAB).key_up(Keys.SHIFT).perform()
    until("a hover is shown", lambda: "length in m" in js("const c = document.querySelector('.jp-Tooltip'); return c ? c.innerText : '';"), 20)
    driver.save_screenshot(str(out / "hover-dark.png"))
    command("apputils:change-theme", "{theme: 'JupyterLab Light'}")
    time.sleep(1)
    driver.save_screenshot(str(out / "hover-light.png"))
    highlighted = js("return document.querySelectorAll('.cm-content [class*=ͼ]').length;")
    print(f"endless loop interrupted in {took:.2f} s; completion and hover while it ran; completer and hover seen; {highlighted} highlighted tokens", flush=True)
finally:
    if driver:
        driver.quit()
    server.terminate()
    try:
        server.wait(10)
    except subprocess.TimeoutExpired:
        server.kill()
    shutil.rmtree(work, ignore_errors=True)
