using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>What a family is made for.</summary>
/// <param name="Grid">Cells.</param>
/// <param name="Power">Power of v.</param>
/// <param name="Seen">[cells] whose molecules leave counts in the window.</param>
sealed record ShapeFrame(VelocityGrid Grid, double Power, bool[] Seen);

/// <summary>Every family. To add one, write its file and add its line.</summary>
static class ShapeFamilies
{
    static readonly (string Name, Func<ShapeFrame, IShapeFamily> Make)[] Makers =
    [
        ("effusive", f => new EffusiveFamily(f.Grid, f.Power)),
        ("supersonic", f => new SupersonicFamily(f.Grid, f.Power)),
        ("two-beams", f => new TwoBeamsFamily(f.Grid, f.Power)),
        ("spline", f => new SplineFamily(f.Grid, f.Seen)),
    ];

    public static IReadOnlyList<string> Names { get; } = [.. Makers.Select(m => m.Name)];

    /// <summary>The family of a name, or all of them for "best".</summary>
    public static IReadOnlyList<IShapeFamily> For(string name, ShapeFrame frame)
    {
        IShapeFamily[] made = [.. Makers.Where(m => name == ShapeNames.Best || m.Name == name).Select(m => m.Make(frame))];
        return made.Length > 0 ? made : throw new ArgumentOutOfRangeException(nameof(name), name, $"must be one of {string.Join(", ", ShapeNames.All)}");
    }

    /// <summary>Cases of these families that are not among them.</summary>
    public static IReadOnlyList<IShapeFamily> Beside(IReadOnlyList<IShapeFamily> families, ShapeFrame frame) =>
        [.. families.Select(f => f.Simpler).OfType<string>().Where(s => families.All(f => f.Name != s)).SelectMany(s => For(s, frame))];
}

/// <summary>Names of the families, for the configuration.</summary>
public static class ShapeNames
{
    /// <summary>All families are fitted, and one is chosen.</summary>
    public const string Best = "best";

    public static IReadOnlyList<string> All { get; } = [.. ShapeFamilies.Names, Best];
}
