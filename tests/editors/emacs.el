;;; Drives Emacs with eglot through one sitting at a recipe and writes down what a user would see, as JSON into $RESULT.
;;; Judged by test_emacs.py. Uses the very file that users copy: editors/emacs/scruple.el.  -*- lexical-binding: t; -*-

(require 'package)
(package-initialize)
(require 'json)
(require 'cl-lib)
(add-to-list 'load-path (concat (getenv "EDITORS") "/emacs"))
(require 'scruple)
(require 'flymake)

(setq scruple-command (list (getenv "SCRUPLE") "serve")
      eglot-sync-connect 60
      eglot-send-changes-idle-time 0
      flymake-no-changes-timeout 0.05
      create-lockfiles nil
      make-backup-files nil)

(defvar seen nil)
(defun see (name value) (push (cons name value) seen))

(defun wait-for (what condition)
  "Let Emacs work until CONDITION holds; WHAT says what is waited for."
  (let ((deadline (+ (float-time) 60)))
    (while (not (funcall condition))
      (when (> (float-time) deadline) (error "Waited in vain for %s" what))
      (accept-process-output nil 0.05))))

(defun codes ()
  "What Flymake shows in this buffer."
  (mapcar #'flymake-diagnostic-text (flymake-diagnostics)))

(defun sitting ()
  (find-file (getenv "RECIPE"))
  (see 'mode (symbol-name major-mode))
  (see 'comment comment-start)
  (apply #'eglot (eglot--guess-contact))
  (wait-for "the server" #'eglot-managed-p)
  (let ((server (eglot-current-server)))
    (goto-char (point-min))
    (search-forward (getenv "NAME"))
    (backward-char 3)
    (let ((hover (jsonrpc-request server :textDocument/hover (eglot--TextDocumentPositionParams))))
      (see 'hover (plist-get (plist-get hover :contents) :value)))
    (let ((found (xref-backend-definitions 'eglot "")))
      (see 'definition (xref-file-location-file (xref-item-location (car found)))))
    (goto-char (point-max))
    (insert "\nsolution Try µ\n    1,5 g      sodium chloride\n    q.s.       water to 1 L\n")
    (eglot--signal-textDocument/didChange)
    (wait-for "the finding" (lambda () (flymake-start) (cl-some (lambda (text) (string-match-p "decimal-comma" text)) (codes))))
    (see 'findings (vconcat (codes)))
    (goto-char (point-max))
    (insert "    2 g        sodium chlor")
    (eglot--signal-textDocument/didChange)
    (let* ((offered (funcall (cl-find-if #'functionp completion-at-point-functions)))
           (all (and offered (all-completions "sodium chlor" (nth 2 offered)))))
      (see 'completions (vconcat (mapcar #'substring-no-properties all))))
    (set-buffer-modified-p nil)
    (let ((process (jsonrpc--process server)))
      (eglot-shutdown server)
      (see 'ended (not (process-live-p process))))))

(condition-case problem
    (sitting)
  (error (see 'problem (error-message-string problem))))
(with-temp-file (getenv "RESULT") (insert (json-encode seen)))
(kill-emacs 0)
