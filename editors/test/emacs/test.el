;;; test.el --- Emacs with eglot and Portlight -*- lexical-binding: t; -*-

;; Works on the networks of testdata/editors as a user would, and writes one
;; line for every assertion.  Run in a copy of that folder.

;;; Code:

(set-language-environment "UTF-8")
(package-initialize)

;; The set-up of the page.
(add-to-list 'load-path (concat (getenv "EDITORS") "/emacs"))
(require 'portlight-mode)
(add-hook 'portlight-mode-hook #'eglot-ensure)

(require 'eglot)
(require 'flymake)
(setq make-backup-files nil
      create-lockfiles nil
      eglot-confirm-server-initiated-edits nil
      eglot-sync-connect 30
      eglot-autoshutdown t)

(defvar test-name (getenv "NAME"))
(defvar test-failures 0)

(defun test-check (what good seen)
  "Write that WHAT is GOOD, or what was SEEN instead."
  (unless good (setq test-failures (1+ test-failures)))
  (let ((coding-system-for-write 'utf-8))
    (write-region (if good (format "ok %s: %s\n" test-name what)
                    (format "FAILED %s: %s; seen: %s\n" test-name what seen))
                  nil (getenv "OUTPUT") t 'quiet)))

(defmacro test-wait (&rest body)
  "Evaluate BODY until it gives a value, for up to 20 seconds."
  `(let ((end (time-add nil 20)) value)
     (while (and (not (setq value (progn ,@body))) (time-less-p nil end))
       (accept-process-output nil 0.05)
       (test-idle))
     value))

(defun test-idle ()
  "Do what Emacs does when it idles, which it never does in batch."
  (when (and (bound-and-true-p eglot--managed-mode) eglot--recent-changes)
    (eglot--signal-textDocument/didChange)))

(defun test-go (text &optional into)
  "Put point on TEXT, INTO characters behind its start."
  (goto-char (point-min))
  (search-forward text)
  (goto-char (+ (match-beginning 0) (or into 0))))

(defun test-findings ()
  "What flymake shows."
  (mapcar (lambda (d) (list (flymake-diagnostic-beg d) (flymake-diagnostic-end d) (flymake-diagnostic-text d)))
          (flymake-diagnostics)))

(defun test-finding (text)
  "The finding whose message holds TEXT."
  (seq-find (lambda (f) (string-match-p (regexp-quote text) (nth 2 f))) (test-findings)))

(defun test-text () (buffer-substring-no-properties (point-min) (point-max)))
(defun test-has (text) (string-match-p (regexp-quote text) (test-text)))

(defun test-file (name)
  (with-temp-buffer (insert-file-contents name) (buffer-string)))

(defun test-write (name text)
  (let ((coding-system-for-write 'utf-8)) (write-region text nil name nil 'quiet)))

(defun test-shown ()
  (test-check "the mode is chosen" (eq major-mode 'portlight-mode) major-mode)
  (test-check "the server runs" (test-wait (eglot-current-server)) "no server")
  (test-go "Ll]")
  (let* ((at (point))
         (found (test-wait (test-finding "there is no part named Ll"))))
    (test-check "finding shown at its place" (and found (= (nth 0 found) at) (= (nth 1 found) (+ at 2))) (test-findings))
    (test-check "finding drawn in the text"
                (seq-some (lambda (o) (overlay-get o 'flymake-diagnostic)) (overlays-at at)) (overlays-at at))))

(defun test-repaired ()
  (test-go "Ll]")
  (let ((last-nonmenu-event t) ; as after a key: a list means the mouse
        offered)
    (cl-letf (((symbol-function 'completing-read)
               (lambda (_prompt collection &rest _)
                 (setq offered (all-completions "" collection))
                 (seq-find (lambda (title) (string-match-p "Write L1" title)) offered))))
      (call-interactively #'eglot-code-actions))
    (test-check "quick fix applied" (test-wait (test-has "plus -[𝑅s]-[L1]- rail -[")) (or offered (test-text)))
    (test-check "finding gone after the fix" (test-wait (not (test-finding "named Ll"))) (test-findings))))

(defun test-hovered ()
  (test-go "port logger" 6)
  (let (seen)
    (eglot-hover-eldoc-function (lambda (text &rest _) (setq seen (and text (substring-no-properties text)))))
    (test-wait seen)
    (test-check "hover names the port and answers"
                (and seen (string-match-p "port logger, \\+ at rail" seen) (string-match-p "Ω" seen)) seen)
    (test-check "hover is plain text" (and seen (not (string-match-p "```\\|\\*\\*\\|data:image" seen))) seen)))

(defun test-completed ()
  (test-go "rail -[Rload]")
  (end-of-line)
  (insert "\ntell v[rai")
  (completion-at-point)
  (test-wait (test-has "tell v[rail"))
  (insert "] at 1 ms")
  (test-check "completion inserts the node" (test-has "\ntell v[rail] at 1 ms\n") (test-text)))

(defun test-changed ()
  (test-idle)
  (let ((before (test-file "bank.plight")))
    (test-write "bank.plight" (replace-regexp-in-string "Vlimit" "Vhigh" before))
    (test-check "a change of a used file by another program shows up"
                (test-wait (test-finding "nothing named Vlimit")) (test-findings))
    (test-write "bank.plight" before)
    (test-check "and its undoing too" (test-wait (not (test-finding "nothing named Vlimit"))) (test-findings))))

(defun test-renamed ()
  (test-go "rail -[part" 1)
  (eglot-rename "bus")
  (test-idle)
  (test-check "rename changes every place"
              (and (test-wait (not (test-has "rail"))) (= 6 (how-many "\\_<bus\\_>" (point-min) (point-max)))) (test-text))
  (test-go "<= Vlimit" 4)
  (cl-letf (((symbol-function 'y-or-n-p) #'always)) ; the edit reaches a file that is not open
    (eglot-rename "Vmax"))
  (test-idle)
  (save-some-buffers t)
  (test-check "rename reaches the used file"
              (and (test-has "<= Vmax") (string-match-p "let Vmax = 15 V" (test-file "bank.plight")))
              (test-file "bank.plight")))

(defun test-formatted ()
  (save-buffer)
  (let ((wanted (with-temp-buffer
                  (call-process "portlight" nil t nil "tidy" (expand-file-name "logger.plight"))
                  (buffer-string))))
    (eglot-format-buffer)
    (test-check "format gives what the command tidy gives" (string= wanted (test-text)) (test-text))
    (test-check "format aligned the parts" (test-has "inductor        L1     = 47 µH") (test-text))))

(condition-case problem
    (progn
      (find-file "logger.plight")
      (unless (eglot-current-server) ; `eglot-ensure' waits for a command, which batch has none of
        (apply #'eglot (eglot--guess-contact)))
      (test-shown)
      (test-repaired)
      (test-hovered)
      (test-completed)
      (test-changed)
      (test-renamed)
      (test-formatted))
  (error (test-check "the test runs to its end" nil (error-message-string problem))))
(ignore-errors (eglot-shutdown (eglot-current-server)))
(kill-emacs (if (= test-failures 0) 0 1))
;;; test.el ends here
