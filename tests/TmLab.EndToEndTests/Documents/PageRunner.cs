using System.Diagnostics;
using TmLab.EndToEndTests.Running;
using TmLab.TestKit;

namespace TmLab.EndToEndTests.Documents;

/// <summary>
/// Runs a page's command blocks in order, in one shell and one folder that holds a copy of data-demo. The words tmlab and
/// "dotnet run … --" stand for the program that was built; builds, tests and clones are only checked for the paths they name.
/// </summary>
internal static class PageRunner
{
    private static readonly TimeSpan Timeout = TimeSpan.FromMinutes(2);

    /// <summary>What came of a page.</summary>
    /// <param name="Result">The shell's end.</param>
    /// <param name="CheckedCommands">The commands of this program and of dotnet that were met, in order.</param>
    internal sealed record Outcome(ToolResult Result, IReadOnlyList<string> CheckedCommands);

    public static Outcome Run(DocumentPage page)
    {
        using var work = new TemporaryFolder();
        using var aside = new TemporaryFolder();
        CopyDemoData(work);
        string script = aside.File("page.sh");
        string log = aside.File("commands.log");
        File.WriteAllText(log, "");
        File.WriteAllText(script, Script(page));

        var environment = new Dictionary<string, string>
        {
            ["PROGRAM_FILE"] = Tool.ProgramFile,
            ["REPOSITORY"] = RepositoryFolder.Path,
            ["COMMAND_LOG"] = log,
        };
        using Process process = Tool.StartProgram("bash", work.Path, [script], environment);
        ToolResult result = Tool.Finish(process, Timeout);
        return new Outcome(result, File.ReadAllLines(log));
    }

    private static void CopyDemoData(TemporaryFolder work)
    {
        string demo = RepositoryFolder.Combine("data-demo");
        if (Directory.Exists(demo))
        {
            FolderTree.Copy(demo, work.File("data-demo"));
        }
    }

    /// <summary>The shell says on stderr which line of the page it is at, so that a failure can be found.</summary>
    private static string Script(DocumentPage page)
    {
        IEnumerable<string> blocks = page.ShellBlocks.Select(b => $"echo '[{page.Name}, block at line {b.FirstLine}]' >&2\n{string.Join('\n', b.Lines)}\n");
        return Preamble.ReplaceLineEndings("\n") + string.Concat(blocks);
    }

    private const string Preamble = """
        set -euo pipefail

        refuse() { echo "the documents' test: $1" >&2; exit 64; }

        # Every word that looks like a path into the source tree must lead somewhere.
        check_paths() {
          for word in "$@"; do
            case "$word" in
              src/*|tests/*|*.sln) [ -e "$REPOSITORY/$word" ] || refuse "$word does not exist" ;;
            esac
          done
        }

        tmlab() { echo "tmlab $*" >> "$COMMAND_LOG"; command dotnet "$PROGRAM_FILE" "$@"; }

        dotnet() {
          case "${1-}" in
            run)
              local before=()
              while [ $# -gt 0 ] && [ "$1" != -- ]; do before+=("$1"); shift; done
              check_paths "${before[@]}"
              case " ${before[*]} " in
                *" --project src/TmLab.Cli "*) shift || refuse "dotnet run without -- before the program's words"; tmlab "$@" ;;
                *" --project "*) echo "dotnet ${before[*]}" >> "$COMMAND_LOG" ;;
                *) refuse "dotnet run without --project" ;;
              esac ;;
            test|build|restore|pack|publish|format) check_paths "$@"; echo "dotnet $*" >> "$COMMAND_LOG" ;;
            *) refuse "dotnet ${1-} is not known to it" ;;
          esac
        }

        git() { [ "${1-}" = clone ] || refuse "git ${1-} is not known to it"; cloned=$(basename "${@: -1}" .git); }

        # Changing to the clone changes nothing: the page's folder stands for it.
        cd() { [ "$1" = "${cloned-}" ] || builtin cd "$1"; }

        sudo() { refuse "pages must not need another user's rights"; }


        """;
}
