" Highlighting of Pintle sheets.
if exists('b:current_syntax')
  finish
endif
syntax match pintleProse /^\s*|.*$/
syntax match pintleComment /#.*$/
syntax region pintleText start=/"/ skip=/\\"/ end=/"/ oneline
syntax match pintleNumber /\<\d[0-9_]*\(\.\d\+\)\?\([eE][-+]\?\d\+\)\?\>/
syntax match pintleItem /^\s*\zs\(sheet\|library\|use\|given\|assume\|material\|body\|rotor\|load\|spring\|axis\|unit\|train\|brake\|clutch\|ledger\|run\|cycle\|wanted\|limit\|case\|confirm\|shape\|formula\|component\|part\|vary\|curve\)\>/
syntax keyword pintleClause cite because as within where when otherwise for from to at about of under each every less require offers start end travel gain lose agrees open confirmed named
highlight default link pintleProse Comment
highlight default link pintleComment Comment
highlight default link pintleText String
highlight default link pintleNumber Number
highlight default link pintleItem Statement
highlight default link pintleClause Keyword
let b:current_syntax = 'pintle'
