using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>Number, mean and spread of a spectrum whose cells hold their molecules evenly.</summary>
/// <param name="Number">Molecules a shot.</param>
/// <param name="Mean">m/s.</param>
/// <param name="Spread">Standard deviation, m/s.</param>
public readonly record struct SpectrumMoments(double Number, double Mean, double Spread)
{
    /// <param name="grid">Cells.</param>
    /// <param name="molecules">[cells] molecules a shot.</param>
    public static SpectrumMoments Of(VelocityGrid grid, ReadOnlySpan<double> molecules)
    {
        (double number, double first) = (0, 0);
        for (int c = 0; c < molecules.Length; c++) (number, first) = (number + molecules[c], first + molecules[c] * grid.Centre(c));
        double mean = first / number, second = 0;
        for (int c = 0; c < molecules.Length; c++) second += molecules[c] * (grid.Centre(c) - mean) * (grid.Centre(c) - mean);
        return new SpectrumMoments(number, mean, Math.Sqrt(second / number + grid.Step * grid.Step / 12));
    }
}
