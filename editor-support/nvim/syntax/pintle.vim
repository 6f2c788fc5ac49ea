" Highlighting of Pintle sheets, for Vim and Neovim.
if exists('b:current_syntax')
  finish
endif
let s:cpo_save = &cpo
set cpo&vim

" Later patterns win over earlier ones at the same place.
syntax match pintleOperator /->\|==\|!=\|<=\|>=\|\.\.\|+\/-\|[-+*\/^<>=±·≤≥]/
syntax match pintleFunction /\<[[:alpha:]_]\k*\ze(/
" A definition, with or without its kind: `m = 3 kg`, `m : mass = 3 kg`.
syntax match pintleField /\<[[:alpha:]_]\k*\ze\s*\%(:\|=\%(=\)\@!\)/
syntax match pintleKind /:\s*\zs[[:alpha:]_]\k*/
" A unit follows its number after one blank and holds none itself.
syntax match pintleUnit /\%([[:alpha:]]\|[µΩ°%]\)\%([^][(){}[:space:],;:"#=<>|]\|([^()[:space:]]*)\)*/ contained
syntax match pintleNumber /\<\d[0-9_]*\%(\.\d[0-9_]*\)\?\%([eE][-+]\?\d\+\)\?/ nextgroup=pintleUnit,pintleLine skipwhite
" A keyword is one only where no definition and no kind stands: `load = 3 kg` names a quantity.
syntax match pintleLine /\%(:\s\{0,9}\)\@10<!\.\@1<!\<\%(about\|agrees\|along\|and\|apply\|arcsine\|as\|at\|back\|because\|belt\|by\|choose\|cite\|confirmed\|direct\|down_path\|each\|end\|epicyclic\|every\|failing\|for\|forward\|from\|gain\|gear\|incline\|less\|level\|lose\|normal\|not\|of\|offers\|on\|open\|or\|otherwise\|over\|rack\|release\|require\|rest\|roll\|rope\|screw\|show\|start\|steps\|stop\|through\|to\|travel\|triangular\|under\|uniform\|up_path\|vertical\|when\|where\|within\)\>\%(\s*=[^=]\|\.\|\s*:\)\@!/
syntax match pintleItem /^\s*\zs\%(assume\|axis\|body\|brake\|case\|clutch\|component\|confirm\|curve\|cycle\|formula\|given\|ledger\|library\|limit\|load\|material\|part\|rotor\|run\|shape\|sheet\|spring\|train\|unit\|use\|vary\|wanted\)\>\%(\s*=[^=]\|\.\|\s*:\)\@!/
syntax region pintleText start=/"/ skip=/\\./ end=/"/ end=/$/ oneline
syntax match pintleComment /#.*$/ contains=@Spell
syntax match pintleProse /^\s*|.*$/ contains=@Spell

highlight default link pintleOperator Operator
highlight default link pintleFunction Function
highlight default link pintleKind Type
highlight default link pintleField Identifier
highlight default link pintleUnit Constant
highlight default link pintleNumber Number
highlight default link pintleLine Keyword
highlight default link pintleItem Statement
highlight default link pintleText String
highlight default link pintleComment Comment
highlight default link pintleProse SpecialComment

let b:current_syntax = 'pintle'
let &cpo = s:cpo_save
unlet s:cpo_save
