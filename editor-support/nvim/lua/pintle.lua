-- Starts pintle-server for Pintle sheets; Neovim 0.7 and newer.
--
--   require('pintle').setup()
--   require('pintle').setup({ cmd = { '/opt/pintle/pintle-server', '--log', 'pintle.log' } })
--
-- Every other key of the table goes to the client as it is (on_attach, capabilities, ...).
local M = {}

-- Clients of Neovim 0.7 by their root folder; newer ones keep count themselves.
local clients = {}

-- The folder of the lock file or of the repository, else the sheet's own.
local function root_of(file)
  local folder = vim.fn.fnamemodify(file, ':p:h')
  local here = folder
  while true do
    for _, mark in ipairs({ 'pintle.lock', '.git' }) do
      local path = here .. '/' .. mark
      if vim.fn.filereadable(path) == 1 or vim.fn.isdirectory(path) == 1 then
        return here
      end
    end
    local above = vim.fn.fnamemodify(here, ':h')
    if above == here then
      return folder
    end
    here = above
  end
end

local function attach(buffer, options)
  local config = vim.tbl_extend('force', { name = 'pintle', cmd = { 'pintle-server' } }, options)
  if vim.fn.executable(config.cmd[1]) == 0 then
    vim.notify_once('pintle: `' .. config.cmd[1] .. '` is not on the search path', vim.log.levels.WARN)
    return
  end
  config.root_dir = config.root_dir or root_of(vim.api.nvim_buf_get_name(buffer))
  if vim.lsp.start then
    vim.lsp.start(config, { bufnr = buffer })
    return
  end
  local id = clients[config.root_dir]
  if not id or not vim.lsp.get_client_by_id(id) then
    id = vim.lsp.start_client(config)
    clients[config.root_dir] = id
  end
  if id then
    vim.lsp.buf_attach_client(buffer, id)
  end
end

function M.setup(options)
  options = options or {}
  local group = vim.api.nvim_create_augroup('pintle', { clear = true })
  vim.api.nvim_create_autocmd('FileType', {
    group = group,
    pattern = 'pintle',
    callback = function(event)
      attach(event.buf, options)
    end,
  })
  -- Sheets that were open before.
  for _, buffer in ipairs(vim.api.nvim_list_bufs()) do
    if vim.api.nvim_buf_is_loaded(buffer) and vim.bo[buffer].filetype == 'pintle' then
      attach(buffer, options)
    end
  end
end

return M
