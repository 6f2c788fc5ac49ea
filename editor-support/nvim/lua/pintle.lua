-- Starts pintle-server for sheets; works with Neovim 0.7 and newer.
local M = {}

function M.setup(options)
  options = options or {}
  vim.api.nvim_create_autocmd("FileType", {
    pattern = "pintle",
    callback = function(event)
      if vim.lsp.start then
        vim.lsp.start({ name = "pintle", cmd = options.cmd or { "pintle-server" }, root_dir = vim.fn.getcwd() })
      else
        M.client = M.client
          or vim.lsp.start_client({ name = "pintle", cmd = options.cmd or { "pintle-server" }, root_dir = vim.fn.getcwd() })
        vim.lsp.buf_attach_client(event.buf, M.client)
      end
    end,
  })
end

return M
