using Pipeline.Apparatus;
using Pipeline.Numerics;
using Pipeline.Quantities;

namespace Pipeline.Tests.Apparatus;

/// <summary>What leads from counts to molecules of the species.</summary>
public class AbsoluteNumberTests
{
    /// <summary>CaF, Hz: 0.342488 per cm. The last two digits, which the sums below ask for, are from memory.</summary>
    const double RotationalConstant = 10267.5396e6;

    /// <remarks>Recomputed by this team with eight decimals.</remarks>
    [Theory]
    [InlineData(1, 2.39910841, new[] { 0.41682151, 0.46672584, 0.10836562, 0.00788844 })]
    [InlineData(2, 4.40931854, new[] { 0.22679241, 0.41566649, 0.25857363, 0.08254637 })]
    [InlineData(4, 8.45921810, new[] { 0.11821424, 0.27719708, 0.28224914, 0.18869201 })]
    [InlineData(10, 20.63033240, new[] { 0.04847232, 0.13176925, 0.18032707, 0.18783914 })]
    [InlineData(300, 609.14392528, new[] { 0.00164165, 0.00490879, 0.00812774, 0.01126725 })]
    public void Share_CalciumMonofluoride_Matches(double temperature, double sum, double[] shares)
    {
        Assert.Equal(sum, RotationalLevels.PartitionFunction(RotationalConstant, temperature), 5.1e-9);
        for (int n = 0; n < 4; n++) Assert.Equal(shares[n], RotationalLevels.Share(n, RotationalConstant, temperature), 5.1e-9);
    }

    [Theory]
    [InlineData(0.001)]
    [InlineData(4)]
    [InlineData(30000)]
    public void Share_AllLevels_SumToOne(double temperature) =>
        Assert.Equal(1, Enumerable.Range(0, 3000).Sum(n => RotationalLevels.Share(n, RotationalConstant, temperature)), 12);

    [Fact]
    public void Share_Limits_AreRight()
    {
        Assert.Equal(1, RotationalLevels.Share(0, RotationalConstant, 0.001), 15);
        // kT/hB + 1/3 + hB/(15 kT): Euler and Maclaurin
        double high = 3000 * Codata.BoltzmannConstant / (Codata.PlanckConstant * RotationalConstant);
        Assert.Equal(high + 1.0 / 3 + 1 / (15 * high), RotationalLevels.PartitionFunction(RotationalConstant, 3000), 1e-7);
        Assert.Throws<ArgumentOutOfRangeException>(() => RotationalLevels.Share(-1, 1, 1));
        Assert.Throws<ArgumentOutOfRangeException>(() => RotationalLevels.Share(0, 0, 1));
        Assert.Throws<ArgumentOutOfRangeException>(() => RotationalLevels.Share(0, 1, double.NaN));
    }

    /// <remarks>Recomputed by this team with eight decimals.</remarks>
    [Theory]
    [InlineData(0.1, 0.00250628)]
    [InlineData(0.25, 0.01587708)]
    [InlineData(0.5, 0.06698730)]
    [InlineData(0.7, 0.14292858)]
    [InlineData(1, 0.5)]
    public void SolidAngle_NumericalAperture_Matches(double aperture, double share) =>
        Assert.Equal(share, SolidAngle.FromNumericalAperture(aperture), 5.1e-9);

    /// <remarks>25 mm at 50 mm: recomputed by this team. Close to the lens half the sphere is seen; far off, its area over the sphere's.</remarks>
    [Theory]
    [InlineData(0.025, 0.05, 0.01492875)]
    [InlineData(1, 1e-12, 0.5)]
    [InlineData(1e-6, 1, 6.25e-14)]
    public void SolidAngle_Lens_Matches(double diameter, double distance, double share) =>
        Assert.Equal(1, SolidAngle.FromLens(diameter, distance) / share, 4e-7);

    [Fact]
    public void SolidAngle_BadInput_IsRefused()
    {
        Assert.Throws<ArgumentOutOfRangeException>(() => SolidAngle.FromNumericalAperture(0));
        Assert.Throws<ArgumentOutOfRangeException>(() => SolidAngle.FromNumericalAperture(1.0001));
        Assert.Throws<ArgumentOutOfRangeException>(() => SolidAngle.FromNumericalAperture(double.NaN));
        Assert.Throws<ArgumentOutOfRangeException>(() => SolidAngle.FromLens(0, 1));
        Assert.Throws<ArgumentOutOfRangeException>(() => SolidAngle.FromLens(1, -1));
    }

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
