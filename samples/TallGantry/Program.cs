using GainMargin;
using TallGantry;

// The job: before a position gain goes to the drive, know every gain at which the machine would flutter or diverge.
string output = args.Length > 0 ? args[0] : Path.Combine(AppContext.BaseDirectory, "gantry-boundary.json");
var range = GainRange.Between(0, 12);

Console.WriteLine("A tall gantry milling machine (invented data): position gain screened with the rate loop closed.");
foreach (string scaleAt in new[] { "tool.x", "foot.x" })
{
    var closed = ClosedLoop.Create(Machine.Structure(), Machine.Law(scaleAt));
    var boundary = OnsetFinder.FindAll(GainPath.OneLoop(closed, Machine.Position, range));
    var contribution = ClosedLoopAnalysis.ContributionOf(closed, Machine.Position);

    Console.WriteLine($"\n=== Glass scale at {scaleAt}: sensor and motor {(contribution.IsCollocated ? "at one place" : "apart")} ===\n");
    Console.WriteLine("What the position loop adds to the stiffness, N/m (rows driven, columns sensed):");
    Console.WriteLine(contribution.Stiffness);
    Console.WriteLine($"\nAt the release gain:\n{ClosedLoopAnalysis.Split(closed)}\n");
    Console.WriteLine(boundary);
    foreach (var onset in boundary.Onsets.Where(o => o.Kind == OnsetKind.Flutter).Take(1))
    {
        Console.WriteLine($"\nWhy, at the first onset ({onset.Gain:F3} m/min/mm):");
        Console.WriteLine($"  mode: {onset.RightMode}");
        Console.WriteLine($"  {onset.Energy}");
        Console.WriteLine($"  a force excites it at: {onset.LeftMode}");
        Console.WriteLine($"  the matrices of the onset and its mode fit to a backward error of {onset.BackwardError:G2}");
    }

    if (scaleAt == "tool.x")
    {
        using var file = File.Create(output);
        ResultJson.Write(file, boundary);
    }
}

Console.WriteLine($"\nThe boundary with the scale at the tool is in {output}");
