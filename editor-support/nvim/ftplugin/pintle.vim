" Settings for Pintle sheets.
if exists('b:did_ftplugin')
  finish
endif
let b:did_ftplugin = 1

setlocal commentstring=#\ %s
" `#` begins a comment, `|` a line of prose; both go on with the next line.
setlocal comments=:#,:\|
setlocal formatoptions-=t formatoptions+=croql
setlocal suffixesadd=.pintle
setlocal expandtab shiftwidth=2 softtabstop=2

let b:undo_ftplugin = 'setlocal commentstring< comments< formatoptions< suffixesadd< expandtab< shiftwidth< softtabstop<'
