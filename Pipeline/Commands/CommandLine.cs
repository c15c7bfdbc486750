using System.CommandLine;
using System.CommandLine.Invocation;

namespace Pipeline.Commands;

/// <summary>The commands, and what their exit codes mean.</summary>
static class CommandLine
{
    /// <summary>Every run agrees with its prediction.</summary>
    public const int AllAgree = 0;
    /// <summary>Some disagree or are undecided.</summary>
    public const int SomeDoNot = 1;
    /// <summary>The command line or the configuration is wrong.</summary>
    public const int Usage = 2;
    /// <summary>Some could not be analysed.</summary>
    public const int SomeFailed = 3;

    public static async Task<int> Run(string[] arguments)
    {
        var root = new RootCommand("""
            From raw fluorescence shots of a pulsed molecular beam to velocity spectra, molecule numbers and a verdict against the simulation.

            Exit codes: 0 all agree, 1 some disagree or are undecided, 2 usage or configuration, 3 some could not be analysed.
            """);
        root.Add(NightCommand.Make());
        root.Add(FollowCommand.Make());
        root.Add(StageCommands.Ingest());
        root.Add(StageCommands.Fit());
        root.Add(StageCommands.Compare());
        root.Add(CheckCommand.Make());
        root.Add(PeekCommand.Make());
        if (arguments.Length == 0)
        {
            await root.Parse(["--help"]).InvokeAsync().ConfigureAwait(false);
            return Usage;
        }
        ParseResult parsed = root.Parse(arguments);
        if (parsed.Errors.Count > 0 && parsed.Action is ParseErrorAction error)
        {
            error.ShowHelp = false;
            await parsed.InvokeAsync().ConfigureAwait(false);
            return Usage;
        }
        try
        {
            return await parsed.InvokeAsync(new InvocationConfiguration { EnableDefaultExceptionHandler = false }).ConfigureAwait(false);
        }
        catch (DataFaultException e)
        {
            await Console.Error.WriteLineAsync(e.Fault.ToString()).ConfigureAwait(false);
            return Usage;
        }
        catch (Exception e)
        {
            await Console.Error.WriteLineAsync($"a defect of the program; please report it with what you typed: {e}").ConfigureAwait(false);
            return SomeFailed;
        }
    }
}
