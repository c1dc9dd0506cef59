# Completion of quietslope for fish. To load it for good: quietslope completion fish > ~/.config/fish/completions/quietslope.fish

function __quietslope_complete
    set -l words (commandline -opc)
    set -l current (commandline -ct)
    set -l program quietslope
    string match -q '*/*' -- $words[1]; and set program (string replace -r '^~' $HOME -- $words[1])
    set -l lines ($program --complete fish $words[2..-1] "$current" 2>/dev/null)

    # Folders and files come from fish itself, which knows how the path is quoted so far.
    set -l before (string match -r '^--[^=]*=' -- $current)
    set -l path (string replace -r '^--[^=]*=' '' -- $current)
    set -l kinds '/$'
    switch "$lines[1]"
        case words
            string join -- \n $lines[2..-1]
            return
        case studies
            set kinds '(/|\.ya?ml)$'
        case files
            set kinds ''
        case folders
        case '*'
            return
    end
    for found in (complete -C "'' $path")
        string match -q -r -- $kinds "$found"; and printf '%s\n' "$before$found"
    end
end

complete -c quietslope -f -k -a '(__quietslope_complete)'
