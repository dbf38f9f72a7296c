package randcell

// constructList names what the writer counts; calls of a vocabulary and its units come on top.
const constructList = `
Join
Println
Sprintf
W1 append
W1 argument
W1 assignment
W1 comparison
W1 declaration
W1 element
W1 field
W1 min max
W1 op assignment
W1 operator
W1 return
W2 literal
append
array
assignment
bit operation
break or continue
cell that fails
cell that is interrupted
cell that is refused
cell run again
cell that runs
clear
closure call
closure passed to compiled code
closures that outlive a loop
comma-ok
constant
constant declared again
conversion of whole numbers
copy and append
counted loop
counter
counter called
delete
dependent function made again
embedded struct
error value
fallthrough
field read
field store
function
function call
function declared again, other type
function declared again, same type
function literal
function literal called
function that sets variables
function that sets variables called
function value wrapped
function variable
generic call
generic function
generic type
generic type used
if
if with a statement
increment
int division
interface call
interface type
iota
labelled loop
len
list or map variable
local closure
map literal
map read
map store
math call
method call
method expression
method that changes its receiver
method value
min max
mutual recursion
named results
op assignment
parallel assignment
pointer method
pointer to struct
pointer to variable
range over int
range over map in key order
range over slice
range over string
recursion
several results
shadowing block
shift
slice element
slice literal
slice of interface values
slice store
sort call
state shown
strconv call
strings call
struct in struct
struct literal
struct type
struct type declared again
struct variable
switch
switch without a value
type assertion
type switch
type switch on any
value method
value shown
variable
variable becomes a function
variable declared again, other type
variable declared again, same type
variable made from its earlier self
variadic function
while loop
zero value
`
