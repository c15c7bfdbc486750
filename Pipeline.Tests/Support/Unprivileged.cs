using System.Runtime.InteropServices;

namespace Pipeline.Tests.Support;

/// <summary>Runs code that may not read everything, also where the tests run as root: on Linux a thread can give up its rights to files.</summary>
static partial class Unprivileged
{
    const uint Nobody = 65534;

    [LibraryImport("libc")]
    private static partial int setfsuid(uint user);

    public static void Run(Action act)
    {
        Skip.IfNot(OperatingSystem.IsLinux(), "rights to files are tested on Linux");
        Exception? failure = null;
        var thread = new Thread(() =>
        {
            int before = setfsuid(Nobody);
            try { act(); }
            catch (Exception e) { failure = e; }
            finally { _ = setfsuid((uint)before); }
        });
        thread.Start();
        thread.Join();
        if (failure is not null) throw new Xunit.Sdk.XunitException(failure.ToString());
    }
}
