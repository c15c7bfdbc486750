using System.Runtime.CompilerServices;
using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>Checks of plain facts; each throws with the value and the allowed range.</summary>
static class Guard
{
    public static double Positive(double value, [CallerMemberName] string name = "") =>
        value > 0 && double.IsFinite(value) ? value : throw new ArgumentOutOfRangeException(name, value, "must be positive and finite");

    public static double NotNegative(double value, [CallerMemberName] string name = "") =>
        value >= 0 && double.IsFinite(value) ? value : throw new ArgumentOutOfRangeException(name, value, "must be >= 0 and finite");

    public static double Finite(double value, [CallerMemberName] string name = "") =>
        double.IsFinite(value) ? value : throw new ArgumentOutOfRangeException(name, value, "must be finite");

    public static Measured Positive(Measured value, [CallerMemberName] string name = "")
    {
        Positive(value.Value, name);
        return value;
    }

    public static Measured NotNegative(Measured value, [CallerMemberName] string name = "")
    {
        NotNegative(value.Value, name);
        return value;
    }

    public static Measured Share(Measured value, [CallerMemberName] string name = "") =>
        value.Value is > 0 and <= 1 ? value : throw new ArgumentOutOfRangeException(name, value.Value, "must lie in (0, 1]");

    public static int Positive(int value, [CallerMemberName] string name = "") =>
        value > 0 ? value : throw new ArgumentOutOfRangeException(name, value, "must be positive");
}
