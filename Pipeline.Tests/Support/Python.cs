using System.Diagnostics;

namespace Pipeline.Tests.Support;

/// <summary>Python with h5py, an independent writer and reader of HDF5 files; tests that need it skip where it is absent.</summary>
static class Python
{
    const string Program = "/usr/bin/python3";
    static readonly Lazy<bool> HasH5py = new(() => File.Exists(Program) && Exit("import h5py") == 0);

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

    /// <summary>Runs a script that needs SciPy, and returns what it prints.</summary>
    public static string Run(string path, params string[] arguments)
    {
        Assert.True(File.Exists(Program) && Exit("import scipy.optimize") == 0, "no Python with scipy on this machine");
        using Process process = Begin([path, .. arguments]);
        string output = process.StandardOutput.ReadToEnd(), error = process.StandardError.ReadToEnd();
        process.WaitForExit();
        Assert.True(process.ExitCode == 0, error);
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
