using System.Globalization;

namespace Pipeline.Tests.Support;

/// <summary>Runs a piece of a test as on a machine of another language.</summary>
static class Culture
{
    public static void Run(string name, Action action)
    {
        CultureInfo before = CultureInfo.CurrentCulture;
        try
        {
            CultureInfo.CurrentCulture = CultureInfo.GetCultureInfo(name);
            action();
        }
        finally
        {
            CultureInfo.CurrentCulture = before;
        }
    }
}
