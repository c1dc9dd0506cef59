#compdef quietslope
# Completion of quietslope for zsh. To load it for good, add to ~/.zshrc: source <(quietslope completion zsh)

_quietslope() {
	local program=quietslope line expl
	local -a lines names described
	[[ $words[1] == */* ]] && program=${${(Q)words[1]}/#\~/$HOME}
	lines=("${(@f)$("$program" --complete zsh "${(@Q)words[2,CURRENT-1]}" "${(Q)PREFIX}" 2>/dev/null)}")
	[[ $PREFIX == --*=* ]] && compset -P 1 '*='
	case $lines[1] in
	studies) _files -g '*.(yaml|yml)(-.)' ;;
	files) _files ;;
	folders) _files -/ ;;
	words)
		for line in "${(@)lines[2,-1]}"; do
			if [[ $line == *$'\t'* ]]; then
				described+=("${line/$'\t'/:}")
			else
				names+=("$line")
			fi
		done
		(( $#described )) && _describe -V 'quietslope' described
		(( $#names )) && _wanted -V names expl 'name' compadd -a names
		;;
	esac
}

if [[ $funcstack[1] == _quietslope ]]; then # read from a folder of $fpath
	_quietslope "$@"
else
	(( $+functions[compdef] )) || { autoload -Uz compinit && compinit }
	compdef _quietslope quietslope
fi
