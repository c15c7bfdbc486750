using Pipeline.Apparatus;
using Pipeline.Numerics;
using Pipeline.Quantities;

namespace Pipeline.Tests.Apparatus;

/// <summary>What leads from counts to molecules of the species.</summary>
public class AbsoluteNumberTests
{
    /// <summary>CaF, Hz: 0.342488 per cm. The last two digits, which the sums below ask for, are from memory.</summary>
    const double RotationalConstant = 10267.5396e6;

    /// <remarks>CaF at 606.3 nm and 4 K, 8.3 MHz: 92.2433 MHz and 7.768303e-11 cm^2, recomputed by this team; the width has six digits.</remarks>
    [Fact]
    public void CrossSection_DopplerLimited_Matches()
    {
        double width = Math.Sqrt(8 * Math.Log(2) * Codata.BoltzmannConstant * 4 / (58.96099 * Codata.AtomicMassConstant)) / 606.3e-9;
        Assert.Equal(92.2433e6, width, 51.0);
        Assert.Equal(1, AbsorptionCrossSection.DopplerLimited(606.3e-9, 1, 8.3e6, width) / 7.768303e-15, 1e-6);
        Assert.Equal(1.475665, AbsorptionCrossSection.DopplerLimited(1, 1, 1, 1) * 2 * Math.PI, 6);
    }

    /// <summary>The natural cross-section averaged over the Doppler profile, with the program's own line shape: the limit is reached as the
    /// ratio of widths.</summary>
    [Fact]
    public void CrossSection_NarrowNaturalLine_IsTheAverageOverTheDopplerProfile()
    {
        const double Natural = 1e3, Doppler = 1e8;
        double sigma = Doppler / Math.Sqrt(8 * Math.Log(2)), resonant = 1 / (2 * Math.PI);
        double average = resonant * 0.5 * Math.PI * Natural * Voigt.Density(0, sigma, 0.5 * Natural);
        Assert.Equal(1, AbsorptionCrossSection.DopplerLimited(1, 1, Natural, Doppler) / average, 2e-5);
    }
}
