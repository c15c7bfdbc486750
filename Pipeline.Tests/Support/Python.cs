using System.Diagnostics;

namespace Pipeline.Tests.Support;

/// <summary>Python with h5py, an independent writer and reader of HDF5 files, or with SciPy; tests that need them skip where they are absent.</summary>
static class Python
{
    const string Program = "/usr/bin/python3";
    static readonly Lazy<bool> HasH5py = new(() => File.Exists(Program) && Exit("import h5py") == 0);
    static readonly Lazy<bool> HasSciPy = new(() => File.Exists(Program) && Exit("import scipy.stats") == 0);

    /// <summary>Runs a script with h5py as h5py, numpy as np and the file's path as path.</summary>
    public static string Write(string path, string script, string mode = "w", string options = "")
    {
        Skip.IfNot(HasH5py.Value, "no Python with h5py on this machine");
        using Process process = Start($"import h5py, json, numpy as np\npath = r'{path}'\nf = h5py.File(path, '{mode}'{options})\n{script}\nf.close()");
        string error = process.StandardError.ReadToEnd(), output = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        Assert.True(process.ExitCode == 0, error);
        return output;
    }

    /// <summary>What a script of the repository prints that needs SciPy.</summary>
    /// <param name="script">Path below the repository.</param>
    /// <param name="arguments">Of the script.</param>
    public static string Print(string[] script, params string[] arguments) => Output(Path.Combine([Repository.Root, .. script]), arguments);

    /// <summary>What a script prints that needs SciPy.</summary>
    public static string Scipy(string script) => Output("-c", script);

    static string Output(string first, params string[] rest)
    {
        Skip.IfNot(HasSciPy.Value, "no Python with SciPy on this machine");
        using Process process = Begin([first, .. rest]);
        Task<string> error = process.StandardError.ReadToEndAsync();
        string output = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        Assert.True(process.ExitCode == 0, error.Result);
        return output;
    }

    static int Exit(string script)
    {
        using Process process = Start(script);
        process.StandardError.ReadToEnd();
        process.WaitForExit();
        return process.ExitCode;
    }

    static Process Start(string script) => Begin(["-c", script]);

    static Process Begin(string[] arguments) =>
        Process.Start(new ProcessStartInfo(Program, arguments) { RedirectStandardError = true, RedirectStandardOutput = true, UseShellExecute = false })!;
}
