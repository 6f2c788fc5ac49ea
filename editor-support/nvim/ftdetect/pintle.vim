autocmd BufRead,BufNewFile *.pintle setfiletype pintle
