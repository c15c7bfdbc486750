using System.Globalization;

namespace Pipeline.Tests.Support;

/// <summary>Runs a piece of a test as on a machine of another language.</summary>
static class Culture
{
    /// <summary>Decimal comma and points between thousands, as in de-DE; made here, so that no language data need be installed.</summary>
    static CultureInfo Comma()
    {
        var culture = (CultureInfo)CultureInfo.InvariantCulture.Clone();
        (culture.NumberFormat.NumberDecimalSeparator, culture.NumberFormat.NumberGroupSeparator) = (",", ".");
        return culture;
    }

    public static void Run(string name, Action action)
    {
        CultureInfo before = CultureInfo.CurrentCulture;
        try
        {
            CultureInfo.CurrentCulture = name.Length == 0 ? CultureInfo.InvariantCulture : Comma();
            action();
        }
        finally
        {
            CultureInfo.CurrentCulture = before;
        }
    }
}
