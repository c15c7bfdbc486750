using MathNet.Numerics.LinearAlgebra;
using Pipeline.Apparatus;
using Pipeline.Numerics;
using Pipeline.Quantities;

namespace Pipeline.Tests.Apparatus;

public class HyperfineLevelTests
{
    /// <remarks>Childs, Goodman, Goodman, J. Mol. Spectrosc. 86, 365 (1981), as later papers print them.</remarks>
    static readonly HyperfineConstants CaF = Constants(10267.54, 39.65891, 109.1839, 40.1190, 0.0288);

    static HyperfineConstants Constants(double rotation, double spin, double b, double c, double nuclear = 0) => new()
    {
        RotationalConstant = rotation * 1e6, SpinRotation = spin * 1e6, FermiB = b * 1e6, DipolarC = c * 1e6, NuclearSpinRotation = nuclear * 1e6,
    };

    /// <remarks>Positions of N = 1 in MHz from the mean of all substates, recomputed by this team from constants as they stand in published
    /// codes (SrF, CaOH: source from memory; YbF and CaOH quote b_F; BaF: Phys. Rev. A 98, 032513); half a unit of the last digit.
    /// C_I of SrF, 2.3 kHz, is from memory: without it the second level would be 2 kHz higher. Rows: F and position, rising.</remarks>
    [Theory]
    [InlineData("CaF", new[] { 1, 0, 1, 2 }, new[] { -98.678, -22.421, 24.243, 49.145 })]
    [InlineData("SrF", new[] { 1, 0, 1, 2 }, new[] { -107.750, -58.093, 21.810, 63.182 })]
    [InlineData("YbF", new[] { 1, 0, 2, 1 }, new[] { -128.165, 27.518, 33.007, 63.980 })]
    [InlineData("BaF", new[] { 1, 0, 1, 2 }, new[] { -94.946, -67.133, 22.714, 56.765 })]
    public void Of_FirstRotationalLevel_Matches(string name, int[] f, double[] position)
    {
        IReadOnlyList<HyperfineLevel> levels = HyperfineLevels.Of(Known(name), 1);
        Assert.Equal(f, levels.Select(l => l.F));
        for (int k = 0; k < 4; k++) Assert.Equal(position[k], levels[k].OffsetHz / 1e6, 5.1e-4);
        Assert.Equal(0, levels.Sum(l => l.Weight * l.OffsetHz), 1.0);
    }

    /// <remarks>As above; digits as printed. The protons' coupling is weak: J is good, and the J's are 3/2 gamma apart.</remarks>
    [Fact]
    public void Of_WeakNuclearCoupling_IsOrderedByJ()
    {
        IReadOnlyList<HyperfineLevel> levels = HyperfineLevels.Of(Known("CaOH"), 1);
        Assert.All(levels.Take(2), l => Assert.Equal(-34.79, l.OffsetHz / 1e6, 0.01));
        Assert.Equal(16.447, levels[2].OffsetHz / 1e6, 5.1e-4);
        Assert.Equal(17.962, levels[3].OffsetHz / 1e6, 5.1e-4);
        Assert.Equal([1, 2], levels.Skip(2).Select(l => l.F));
        Assert.All(levels.Take(2), l => Assert.InRange(l.UpperJ, 0, 0.01));
        Assert.All(levels.Skip(2), l => Assert.InRange(l.UpperJ, 0.99, 1));
    }

    /// <remarks>122.555 MHz: recomputed by this team. It is b + c/3 but for the mixing with N = 2.</remarks>
    [Fact]
    public void Of_LowestRotationalLevel_IsSplitByTheContactConstant()
    {
        IReadOnlyList<HyperfineLevel> levels = HyperfineLevels.Of(CaF, 0);
        Assert.Equal([0, 1], levels.Select(l => l.F));
        Assert.Equal(122.555, (levels[1].OffsetHz - levels[0].OffsetHz) / 1e6, 5.1e-4);
        Assert.Equal(109.1839 + 40.1190 / 3, (levels[1].OffsetHz - levels[0].OffsetHz) / 1e6, 3e-3);
    }

    /// <summary>The same Hamiltonian as a matrix over |N m, m_S, m_I&gt;, which shares no formula with the program: all rotational levels,
    /// strong coupling, so that mixing of N and every sign matter.</summary>
    [Theory]
    [InlineData(0)]
    [InlineData(1)]
    [InlineData(2)]
    public void Of_StrongCoupling_AgreesWithTheProductBasis(int n)
    {
        HyperfineConstants k = Constants(1000, -70, 110, 90, 13);
        double[] energies = [.. ProductBasis.Hamiltonian(k, n + 3).Evd(Symmetricity.Symmetric).EigenValues.Select(e => e.Real).Order()];
        int below = 4 * n * n, count = 4 * (2 * n + 1);
        double[] expected = energies[below..(below + count)], found = [.. HyperfineLevels.Of(k, n).SelectMany(l => Enumerable.Repeat(l.OffsetHz, l.Weight))];
        double mean = expected.Average();
        // rounding of 1e11 Hz
        for (int i = 0; i < count; i++) Assert.Equal(expected[i] - mean, found[i], 1.0);
    }

    /// <remarks>Doppler scan at 45 degrees of a beam of 140 m/s, Gaussian with 21.2132 m/s, lines 10 MHz wide at half maximum; per MHz,
    /// recomputed by this team.</remarks>
    [Theory]
    [InlineData(0, 9.37136544028e-5)]
    [InlineData(100, 0.00629888987022)]
    [InlineData(150, 0.00611299156203)]
    [InlineData(200, 0.00180859906205)]
    public void Lines_SlantedScan_GiveTheKnownProfile(double megahertz, double expected)
    {
        SpectralLine[] lines = HyperfineLevels.Lines(HyperfineLevels.Of(CaF, 1));
        double project = Math.Cos(Math.PI / 4) / 606.3e-9 / 1e6, all = lines.Sum(l => l.Weight);
        double found = lines.Sum(l => l.Weight / all * Voigt.Density(megahertz - l.OffsetHz / 1e6 - 140 * project, 21.2132 * project, 5));
        // lines rounded to 1 kHz on a slope of at most one in 16 MHz: 6e-5
        Assert.Equal(1, found / expected, 6e-5);
    }

    /// <remarks>Recoil speeds and kinetic energies at 140 m/s of the usual molecules, recomputed by this team; masses from atomic masses.</remarks>
    [Theory]
    [InlineData(58.96099, 606.3, 0.011162, 1448.051)]
    [InlineData(106.90402, 663.3, 0.005627, 2625.507)]
    [InlineData(192.93727, 552, 0.003747, 4738.439)]
    [InlineData(156.90365, 859.8, 0.002958, 3853.472)]
    [InlineData(56.96533, 626.4, 0.011183, 1399.039)]
    public void RecoilAndEnergy_UsualMolecules_Match(double mass, double nanometres, double recoil, double gigahertz)
    {
        double kilograms = QuantityText.Parse(FormattableString.Invariant($"{mass} u"), Dimension.Mass).Value;
        double metres = QuantityText.Parse(FormattableString.Invariant($"{nanometres} nm"), Dimension.Length).Value;
        Assert.Equal(recoil, Codata.PlanckConstant / (kilograms * metres), 5.1e-7);
        Assert.Equal(gigahertz, 0.5 * kilograms * 140 * 140 / (1e9 * Codata.PlanckConstant), 5.1e-4);
    }

    [Fact]
    public void Constants_BadInput_IsRefused()
    {
        Assert.Throws<ArgumentOutOfRangeException>(() => Constants(0, 1, 1, 1));
        Assert.Throws<ArgumentOutOfRangeException>(() => Constants(1, double.NaN, 1, 1));
        Assert.Throws<ArgumentOutOfRangeException>(() => HyperfineLevels.Of(CaF, -1));
    }

    static HyperfineConstants Known(string name) => name switch
    {
        "CaF" => CaF,
        "SrF" => Constants(7487.60, 74.79485, 97.0834, 30.268, 0.0023),
        "YbF" => Constants(7233.8271, -13.41679, HyperfineConstants.FermiBOf(170.26374, 85.4028), 85.4028),
        "BaF" => Constants(6473.9588, 80.954, 63.509, 8.224),
        _ => Constants(10023.0841, 34.7593, HyperfineConstants.FermiBOf(2.602, 2.053), 2.053),
    };
}
