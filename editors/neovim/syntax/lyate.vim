" Colours for .lyate files; the server says what is right, this only what is what.
if exists('b:current_syntax')
  finish
endif

syntax match lyateComment /#.*$/ contains=@Spell
syntax region lyateString start=/"/ end=/"/ oneline
syntax match lyateKeyword /^\s*\zs\<\(problem\|use\|temperature\|activity\|group\|component\|reaction\|total\|add\|hold\|precipitate\|blend\|balance\|expect\|curve\|case\|without\)\>/
syntax match lyateKeyword /^\s*\zs\(ionic strength\|saturate with\)\>/
syntax match lyateWord /\<\(pKa\|pKsp\|pK\|pH\|pOH\|pe\|potential\|alkalinity\|acidity\|hardness\|carbonate hardness\|fraction\|buffer capacity\|saturation index\|charge imbalance\|dose\|of\|density\|confidence\|blend\|temperature\|case\|ionic strength\|K\|log K(T)\|log K\|log beta\|enthalpy\|heat capacity\|source\|valid\|at\|as\|by\|giving\|added\|precipitated\|total\|over\|points\|from\|to\|between\|and\)\>/
syntax match lyateNumber /[A-Za-z0-9^()\]}]\@1<!\<\d\+\(\.\d\+\)\?\([eE][-+]\?\d\+\)\?\>/
syntax match lyateOperator /<=>\|⇌\|<=\|>=\|±/

highlight default link lyateComment Comment
highlight default link lyateString String
highlight default link lyateKeyword Keyword
highlight default link lyateWord Type
highlight default link lyateNumber Number
highlight default link lyateOperator Operator

let b:current_syntax = 'lyate'
