-- Drives Neovim through one sitting at a recipe and writes down what a user would see, as JSON into $RESULT. Judged by
-- test_neovim.py. Uses the very file that users copy: editors/neovim/scruple.lua.

local seen = {}
local function finish()
  vim.fn.writefile({ vim.json.encode(seen) }, vim.env.RESULT)
  vim.cmd("qall!")
end

local function sitting()
  package.path = vim.env.EDITORS .. "/neovim/?.lua;" .. package.path
  vim.cmd("filetype on")
  require("scruple").setup({ cmd = { vim.env.SCRUPLE, "serve" } })
  vim.cmd.edit(vim.env.RECIPE)
  local buffer = vim.api.nvim_get_current_buf()
  seen.filetype = vim.bo.filetype
  seen.commentstring = vim.bo.commentstring

  local function wait(what, condition)
    if not vim.wait(20000, condition, 10) then
      error("waited in vain for " .. what)
    end
  end
  local function request(method, params)
    local answers = vim.lsp.buf_request_sync(buffer, method, params, 20000)
    for _, answer in pairs(answers or {}) do
      if answer.err then
        error(method .. ": " .. vim.inspect(answer.err))
      end
      return answer.result
    end
    error("no answer to " .. method)
  end
  -- Places are found by their text, since the recipe is the library's and may gain lines.
  local function go_to(text)
    vim.api.nvim_win_set_cursor(0, { 1, 0 })
    if vim.fn.search("\\V" .. text, "cW") == 0 then
      error("not in the recipe: " .. text)
    end
  end
  local function here()
    return vim.lsp.util.make_position_params(0, seen.encoding)
  end
  local function codes()
    local found = {}
    for _, finding in ipairs(vim.diagnostic.get(buffer)) do
      table.insert(found, { code = finding.code, line = finding.lnum + 1, message = finding.message })
    end
    return found
  end

  wait("the server", function()
    return vim.lsp.get_clients({ bufnr = buffer, name = "scruple" })[1]
  end)
  local client = vim.lsp.get_clients({ bufnr = buffer, name = "scruple" })[1]
  wait("the server's answer", function()
    return client.initialized
  end)
  seen.encoding = client.offset_encoding
  seen.root = client.config.root_dir

  -- Reading.
  go_to(vim.env.NAME)
  seen.hover = request("textDocument/hover", here())
  seen.definition = request("textDocument/definition", here())
  wait("values beside the text", function()
    return #vim.lsp.inlay_hint.get({ bufnr = buffer }) > 0
  end)
  seen.hints = {}
  for _, hint in ipairs(vim.lsp.inlay_hint.get({ bufnr = buffer })) do
    table.insert(seen.hints, { line = hint.inlay_hint.position.line + 1, label = hint.inlay_hint.label })
  end
  seen.symbols = request("textDocument/documentSymbol", { textDocument = vim.lsp.util.make_text_document_params() })
  seen.before = codes()

  -- Writing: a line with a decimal comma, behind characters of more than one byte.
  local last = vim.api.nvim_buf_line_count(buffer)
  vim.api.nvim_buf_set_lines(buffer, last, last, false, { "", "solution Try µ", "    1,5 g      sodium chloride", "    q.s.       water to 1 L" })
  wait("the finding", function()
    for _, finding in ipairs(codes()) do
      if finding.code == "decimal-comma" then
        return true
      end
    end
  end)
  seen.after = codes()
  go_to("1,5 g")
  local context = { diagnostics = {}, only = { "quickfix" } }
  local params = vim.lsp.util.make_range_params(0, seen.encoding)
  params.context = context
  local actions = request("textDocument/codeAction", params)
  seen.actions = vim.tbl_map(function(action)
    return action.title
  end, actions)
  vim.lsp.util.apply_workspace_edit(actions[1].edit, seen.encoding)
  seen.fixed = vim.api.nvim_buf_get_lines(buffer, last + 2, last + 3, false)[1]
  wait("the finding to go", function()
    for _, finding in ipairs(codes()) do
      if finding.code == "decimal-comma" then
        return false
      end
    end
    return true
  end)

  -- Completing a name.
  vim.api.nvim_buf_set_lines(buffer, last + 3, last + 3, false, { "    2 g        sodium chlor" })
  vim.api.nvim_win_set_cursor(0, { last + 4, 26 })
  local completion = here()
  completion.position.character = 26
  local offered = request("textDocument/completion", completion)
  seen.completions = vim.tbl_map(function(item)
    return item.label
  end, offered.items or offered)

  -- The built-in library opens like any file, in the same server.
  go_to(vim.env.NAME)
  vim.lsp.util.show_document(seen.definition[1] or seen.definition, seen.encoding, { focus = true })
  seen.library_file = vim.api.nvim_buf_get_name(0)
  seen.library_line = vim.api.nvim_get_current_line()
  wait("the library file to have a server", function()
    return vim.lsp.get_clients({ bufnr = 0, name = "scruple" })[1]
  end)
  seen.servers = #vim.lsp.get_clients({ name = "scruple" })
  seen.pid = vim.fn.getpid()
end

local good, problem = xpcall(sitting, debug.traceback)
if not good then
  seen.problem = problem
end
finish()
