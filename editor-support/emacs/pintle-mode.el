;;; pintle-mode.el --- Pintle calculation sheets  -*- lexical-binding: t; -*-

;; Version: 0.1.0
;; Package-Requires: ((emacs "27.1"))
;; Keywords: languages
;; SPDX-License-Identifier: MIT

;;; Commentary:

;; Colours, comments and indentation for .pintle files, and the entry that lets
;; Eglot start pintle-server:
;;
;;   (add-to-list 'load-path "PATH_OF_CLONE/editor-support/emacs")
;;   (require 'pintle-mode)
;;   (add-hook 'pintle-mode-hook #'eglot-ensure)

;;; Code:

(defgroup pintle nil
  "Pintle calculation sheets."
  :group 'languages)

(defcustom pintle-server-command '("pintle-server")
  "The language server and its arguments."
  :type '(repeat string))

(defcustom pintle-indent 2
  "Columns by which a line inside brackets is indented."
  :type 'integer
  :safe #'integerp)

(defconst pintle-item-keywords
  '("assume" "axis" "body" "brake" "case" "clutch" "component" "confirm" "curve" "cycle" "formula"
    "given" "ledger" "library" "limit" "load" "material" "part" "rotor" "run" "shape" "sheet"
    "spring" "train" "unit" "use" "vary" "wanted")
  "Words that begin an item.")

(defconst pintle-line-keywords
  '("about" "agrees" "along" "and" "apply" "arcsine" "as" "at" "back" "because" "belt" "by" "choose"
    "cite" "confirmed" "direct" "down_path" "each" "end" "epicyclic" "every" "failing" "for"
    "forward" "from" "gain" "gear" "incline" "less" "level" "lose" "normal" "not" "of" "offers" "on"
    "open" "or" "otherwise" "over" "rack" "release" "require" "rest" "roll" "rope" "screw" "show"
    "start" "steps" "stop" "through" "to" "travel" "triangular" "under" "uniform" "up_path"
    "vertical" "when" "where" "within")
  "Words that stand in a line.")

(defvar pintle-mode-syntax-table
  (let ((table (make-syntax-table)))
    (modify-syntax-entry ?# "<" table)
    (modify-syntax-entry ?\n ">" table)
    (modify-syntax-entry ?\" "\"" table)
    (modify-syntax-entry ?_ "_" table)
    (dolist (mark '(?+ ?- ?* ?/ ?^ ?= ?< ?> ?| ?% ?. ?± ?· ?°))
      (modify-syntax-entry mark "." table))
    table))

(defconst pintle--no-name-behind "[ \t]*\\(?:=[^=]\\|[.:]\\)"
  "What follows a word that is a name, not a keyword.")

(defun pintle--keyword-matcher (words before)
  "Return a font-lock matcher for WORDS behind BEFORE that are no names."
  (let ((pattern (concat before "\\(" (regexp-opt words) "\\)\\_>")))
    (lambda (limit)
      (let (found)
        (while (and (not found) (re-search-forward pattern limit t))
          (setq found (and (not (save-match-data (looking-at pintle--no-name-behind)))
                           ;; Behind a dot it is a member, behind a colon a kind.
                           (not (save-excursion
                                  (goto-char (match-beginning 1))
                                  (skip-chars-backward " \t")
                                  (or (eq (char-before) ?:)
                                      (eq (char-before (match-beginning 1)) ?.)))))))
        found))))

(defconst pintle-font-lock-keywords
  `((,(pintle--keyword-matcher pintle-item-keywords "^[ \t]*") (1 font-lock-keyword-face))
    (,(pintle--keyword-matcher pintle-line-keywords "\\_<") (1 font-lock-builtin-face))
    (":[ \t]*\\([[:alpha:]_][[:alnum:]_]*\\)" (1 font-lock-type-face))
    ("\\_<\\([[:alpha:]_][[:alnum:]_]*\\)[ \t]*\\(?::\\|=\\(?:[^=]\\|$\\)\\)" (1 font-lock-variable-name-face))
    ("\\_<\\([[:alpha:]_][[:alnum:]_]*\\)(" (1 font-lock-function-name-face))
    ;; A unit follows its number after one blank and holds none itself.
    (,(concat "\\_<[0-9][0-9_]*\\(?:\\.[0-9][0-9_]*\\)?\\(?:[eE][-+]?[0-9]+\\)? "
              "\\([[:alpha:]µΩ°%]\\(?:[^][(){} \t\n,;:\"#=<>|]\\|([^() \t\n]*)\\)*\\)")
     (1 font-lock-constant-face)))
  "Colours of `pintle-mode'.")

(defconst pintle--syntax-propertize
  (syntax-propertize-rules ("^[ \t]*\\(|\\)" (1 "<")))
  "Prose, from a bar at the start of a line to its end, is a comment to Emacs.")

(defun pintle--syntactic-face (state)
  "Return the face for the string or comment that STATE tells of."
  (cond ((nth 3 state) font-lock-string-face)
        ((eq (char-after (nth 8 state)) ?|) font-lock-doc-face)
        (t font-lock-comment-face)))

(defun pintle-indent-line ()
  "Indent by the depth of the brackets around the line."
  (interactive)
  (let ((column (save-excursion
                  (beginning-of-line)
                  (let ((depth (car (syntax-ppss))))
                    (skip-chars-forward " \t")
                    (when (looking-at "[]})]")
                      (setq depth (1- depth)))
                    (* pintle-indent (max 0 depth))))))
    (if (<= (current-column) (current-indentation))
        (indent-line-to column)
      (save-excursion (indent-line-to column)))))

;;;###autoload
(define-derived-mode pintle-mode prog-mode "Pintle"
  "Major mode for Pintle calculation sheets."
  (setq-local comment-start "# ")
  (setq-local comment-start-skip "#+[ \t]*")
  (setq-local comment-end "")
  (setq-local indent-tabs-mode nil)
  (setq-local indent-line-function #'pintle-indent-line)
  (setq-local syntax-propertize-function pintle--syntax-propertize)
  (setq-local font-lock-defaults
              '(pintle-font-lock-keywords nil nil nil
                (font-lock-syntactic-face-function . pintle--syntactic-face))))

;;;###autoload
(add-to-list 'auto-mode-alist '("\\.pintle\\'" . pintle-mode))

(defvar eglot-server-programs)
(with-eval-after-load 'eglot
  (add-to-list 'eglot-server-programs
               (cons 'pintle-mode (lambda (&rest _) pintle-server-command))))

(provide 'pintle-mode)

;;; pintle-mode.el ends here
